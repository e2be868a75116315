def intersect(a,b,t): return []
def overlap(a,b,t): return []
def nearest(c,p): return (min(abs(c.point(k/50)-p) for k in range(51)),0.5)

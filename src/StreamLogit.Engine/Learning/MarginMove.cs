using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>
/// How far updates that cannot overshoot move the margin m, the log-odds of what was the case. Both solve F(d) = a for d >= 0, where F is
/// convex and rises from F(0) = 0, by Newton's method from above the root, which then falls to it without crossing.
/// </summary>
internal static class MarginMove
{
    // For margins below this e^m is less than half a unit in the last place of 1, and the loss is a straight line.
    private const double StraightBelow = -40;
    private const int MostIterations = 64;

    /// <summary>
    /// The limit of infinitely many infinitely small gradient steps of the total length a: d + e^m (e^d - 1) = a
    /// (Karampatziakis &amp; Langford 2011, whose solution by the Lambert function is the same).
    /// </summary>
    /// <param name="m">The margin.</param>
    /// <param name="a">Step * weight * squared length of x, 0 or more.</param>
    public static T ByGradientFlow<T>(T m, T a) where T : struct, ILanes<T>
    {
        // Down there the margin moves by a itself; only what is left of a beyond that needs solving.
        T straight = T.Of(StraightBelow) - m;
        straight = Least(a, Greatest(straight, T.Of(0)));
        T start = Greatest(m, T.Of(StraightBelow));
        T rest = a - straight;

        // Divided by e^m where that is above 1, so that nothing overflows: c d + e (e^d - 1) = c a.
        T c = LaneMath.Exp(T.Of(0) - Greatest(start, T.Of(0)));
        T e = LaneMath.Exp(Least(start, T.Of(0)));
        T target = c * rest;
        T d = Least(rest, LaneMath.Log1p(target / e));
        for (int i = 0; i < MostIterations; i++)
        {
            T exp = LaneMath.Exp(d);
            T next = d - (c * d + e * (exp - T.Of(1)) - target) / (c + e * exp);
            if (!Advance(ref d, next)) break;
        }
        return straight + d;
    }

    /// <summary>The proximal step, to the mode of a normal distribution of the margin and one label: d (1 + e^(m + d)) = a.</summary>
    /// <param name="m">The margin.</param>
    /// <param name="a">Variance of the margin * weight of the label, 0 or more.</param>
    public static T ByProximalStep<T>(T m, T a) where T : struct, ILanes<T>
    {
        // With d = offset + t: (offset + t) (1 + e^(start + t)) = a. Where a <= offset the exponential is nothing and d = a.
        T offset = Greatest(T.Of(StraightBelow) - m, T.Of(0));
        T start = Greatest(m, T.Of(StraightBelow));
        T c = LaneMath.Exp(T.Of(0) - Greatest(start, T.Of(0)));
        T e = LaneMath.Exp(Least(start, T.Of(0)));
        T target = c * a;
        T t = Greatest(Least(a - offset, Greatest(LaneMath.Log(target / e), T.Of(1))), T.Of(0));
        for (int i = 0; i < MostIterations; i++)
        {
            T exp = e * LaneMath.Exp(t);
            T d = offset + t;
            T next = t - (d * (c + exp) - target) / (c + exp + d * exp);
            if (!Advance(ref t, Greatest(next, T.Of(0)))) break;
        }
        return T.Select(T.Greater(a, offset), offset + t, a);
    }

    // A lane stops where it no longer falls, whatever its neighbours do, so that the width changes no bit.
    private static bool Advance<T>(ref T root, T next) where T : struct, ILanes<T>
    {
        T falls = T.Greater(root, next);
        root = T.Select(falls, next, root);
        return T.Any(falls);
    }

    private static T Least<T>(T a, T b) where T : struct, ILanes<T> => T.Select(T.Greater(a, b), b, a);

    private static T Greatest<T>(T a, T b) where T : struct, ILanes<T> => T.Select(T.Greater(a, b), a, b);
}

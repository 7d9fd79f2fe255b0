using System.Runtime.CompilerServices;
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

    // Newton's method squares the relative error with each step, so that a step below this leaves nothing to correct.
    private const double LastStep = 1e-8;

    /// <summary>
    /// The limit of infinitely many infinitely small gradient steps of the total length a: d + e^m (e^d - 1) = a
    /// (Karampatziakis &amp; Langford 2011, whose solution by the Lambert function is the same).
    /// </summary>
    /// <param name="m">The margin.</param>
    /// <param name="a">Step * weight * squared length of x, 0 or more.</param>
    [MethodImpl(MethodImplOptions.NoInlining)]
    public static T ByGradientFlow<T>(T m, T a) where T : struct, ILanes<T>
    {
        // Down there the margin moves by a itself; only what is left of a beyond that needs solving.
        T straight = Least(a, Greatest(T.Of(StraightBelow) - m, T.Of(0)));
        T start = Greatest(m, T.Of(StraightBelow));
        T rest = a - straight;

        // Divided by e^m where that is above 1, so that nothing overflows: c d + e (e^d - 1) = c a.
        Divide(start, out T c, out T e);
        T target = c * rest;
        T d = Least(rest, Log1p(target / e));
        T moves = T.GreaterOrEqual(d, T.Of(0));
        for (int i = 0; i < MostIterations && T.Any(moves); i++)
        {
            T exp = Exp(d);
            Advance(ref d, ref moves, d - (c * d + e * (exp - T.Of(1)) - target) / (c + e * exp));
        }
        return straight + d;
    }

    /// <summary>The proximal step, to the mode of a normal distribution of the margin and one label: d (1 + e^(m + d)) = a.</summary>
    /// <param name="m">The margin.</param>
    /// <param name="a">Variance of the margin * weight of the label, 0 or more.</param>
    [MethodImpl(MethodImplOptions.NoInlining)]
    public static T ByProximalStep<T>(T m, T a) where T : struct, ILanes<T>
    {
        // With d = offset + t: (offset + t) (1 + e^(start + t)) = a. Where a <= offset the exponential is nothing and d = a.
        T offset = Greatest(T.Of(StraightBelow) - m, T.Of(0));
        T start = Greatest(m, T.Of(StraightBelow));
        Divide(start, out T c, out T e);
        T target = c * a;

        // Of the bounds a - offset and, where the root is above 1, ln(target / e).
        T bound = Log1p(target / e);
        T t = Greatest(Least(a - offset, Greatest(bound, T.Of(1))), T.Of(0));
        T moves = T.GreaterOrEqual(t, T.Of(0));
        for (int i = 0; i < MostIterations && T.Any(moves); i++)
        {
            T exp = e * Exp(t);
            T d = offset + t;
            Advance(ref t, ref moves, t - (d * (c + exp) - target) / (c + exp + d * exp));
        }
        return T.Select(T.Greater(a, offset), offset + t, a);
    }

    // 1 and e^m, both divided by the greater.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Divide<T>(T m, out T one, out T exp) where T : struct, ILanes<T>
    {
        T isPositive = T.Greater(m, T.Of(0));
        T small = Exp(T.Of(0) - T.Abs(m));
        one = T.Select(isPositive, small, T.Of(1));
        exp = T.Select(isPositive, T.Of(1), small);
    }

    // Called, because the compiler gives up inlining within a method that has too much of it.
    [MethodImpl(MethodImplOptions.NoInlining)]
    private static T Exp<T>(T x) where T : struct, ILanes<T> => LaneMath.Exp(x);

    [MethodImpl(MethodImplOptions.NoInlining)]
    private static T Log1p<T>(T x) where T : struct, ILanes<T> => LaneMath.Log1p(x);

    // A lane that has come to rest stays there, whatever its neighbours do, so that the width changes no bit.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Advance<T>(ref T root, ref T moves, T next) where T : struct, ILanes<T>
    {
        next = Greatest(next, T.Of(0));
        T step = root - next;
        root = T.Select(moves & T.Greater(step, T.Of(0)), next, root);
        moves &= T.Greater(step, T.Of(LastStep) * next);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T Least<T>(T a, T b) where T : struct, ILanes<T> => T.Select(T.Greater(a, b), b, a);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T Greatest<T>(T a, T b) where T : struct, ILanes<T> => T.Select(T.Greater(a, b), a, b);
}

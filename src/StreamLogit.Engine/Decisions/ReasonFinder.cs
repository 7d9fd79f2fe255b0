using StreamLogit.Engine.Features;

namespace StreamLogit.Engine.Decisions;

/// <summary>Finds the features that moved a score the most.</summary>
internal sealed class ReasonFinder(int features)
{
    private readonly double[] _contributions = new double[features];

    /// <summary>
    /// A feature's contribution is the sum over its entries of coefficient (value - running mean), the mean taken over the events before this one.
    /// The largest by magnitude come first; of equal ones, the feature that the definition names first.
    /// </summary>
    /// <param name="vector">The event.</param>
    /// <param name="coefficients">The published coefficient of each entry.</param>
    /// <param name="eventsBefore">Events encoded before this one.</param>
    /// <param name="reasons">Where they go.</param>
    /// <returns>How many were found: as many as fit, or as there are features.</returns>
    public int Find(VectorBuilder vector, ReadOnlySpan<double> coefficients, long eventsBefore, Span<Reason> reasons)
    {
        Array.Clear(_contributions);
        double perEvent = 1.0 / Math.Max(eventsBefore, 1);
        var values = vector.Vector.Values;
        for (int i = 0; i < vector.Count; i++)
            _contributions[vector.Features[i]] += coefficients[i] * (values[i] - vector.SumsBefore[i] * perEvent);

        int found = 0;
        for (int feature = 0; feature < _contributions.Length; feature++)
        {
            double size = Math.Abs(_contributions[feature]);
            int place = found;
            while (place > 0 && Math.Abs(reasons[place - 1].Contribution) < size) place--;
            if (place == reasons.Length) continue;
            if (found < reasons.Length) found++;
            for (int i = found - 1; i > place; i--) reasons[i] = reasons[i - 1];
            reasons[place] = new Reason(feature, _contributions[feature], vector.Figures[feature]);
        }
        return found;
    }
}

using System.Collections.Immutable;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Health.Metrics;

/// <summary>Makes <see cref="ScoreGroup"/>s of predictions and labels.</summary>
public static class ScoreGroups
{
    /// <summary>One group for each different probability, from the lowest to the highest; exact.</summary>
    /// <param name="probabilities">What was published, 0 to 1.</param>
    /// <param name="labels">What happened, 0 or 1 each.</param>
    /// <param name="weights">Their weights, or nothing where each counts once.</param>
    public static ImmutableArray<ScoreGroup> Of(
        ReadOnlySpan<double> probabilities, ReadOnlySpan<int> labels, ReadOnlySpan<double> weights = default)
    {
        if (labels.Length != probabilities.Length || (weights.Length != 0 && weights.Length != labels.Length))
            throw new ArgumentException("There must be as many labels, and weights where there are any, as probabilities.");
        double[] keys = probabilities.ToArray();
        int[] order = new int[keys.Length];
        for (int i = 0; i < order.Length; i++) order[i] = i;
        Array.Sort(keys, order);

        var groups = ImmutableArray.CreateBuilder<ScoreGroup>();
        for (int start = 0, end; start < keys.Length; start = end)
        {
            double weight = 0, positive = 0, squared = 0;
            for (end = start; end < keys.Length && keys[end] == keys[start]; end++)
            {
                double w = weights.IsEmpty ? 1 : weights[order[end]];
                weight += w;
                squared += w * w;
                if (labels[order[end]] == 1) positive += w;
            }
            if (weight > 0) groups.Add(new ScoreGroup(LogOdds(keys[start]), weight, weight * keys[start], positive, squared, Width: 0));
        }
        return groups.ToImmutable();
    }

    /// <summary>ln(p / (1 - p)): infinite for 0 and 1.</summary>
    public static double LogOdds(double probability) => Elementary.Log(probability) - Elementary.Log1p(-probability);
}

using System.Collections.Immutable;

namespace StreamLogit.Engine.Health.Metrics;

/// <summary>How far, over groups, the mean published probability lies from the observed rate.</summary>
/// <param name="Expected">The mean distance, groups weighted by their labels: the expected calibration error.</param>
/// <param name="Maximum">The largest distance.</param>
/// <param name="RootMeanSquare">The root of the weighted mean squared distance.</param>
public readonly record struct CalibrationError(double Expected, double Maximum, double RootMeanSquare)
{
    /// <summary>The distances over groups made by any rule of <see cref="Grouping"/>.</summary>
    public static CalibrationError Of(ImmutableArray<CalibrationGroup> groups)
    {
        double weight = 0, sum = 0, squares = 0, maximum = 0;
        foreach (var group in groups)
        {
            double distance = Math.Abs(group.ObservedRate - group.MeanProbability);
            weight += group.Weight;
            sum += group.Weight * distance;
            squares += group.Weight * (distance * distance);
            maximum = Math.Max(maximum, distance);
        }
        return groups.IsEmpty ? new(double.NaN, double.NaN, double.NaN) : new(sum / weight, maximum, Math.Sqrt(squares / weight));
    }

    /// <summary>
    /// The expected calibration error over groups of equal size (the first n mod m of them one larger), labels with equal probabilities in the order in
    /// which they are given; such labels may fall into different groups.
    /// </summary>
    public static double OfEqualSizes(ReadOnlySpan<double> probabilities, ReadOnlySpan<int> labels, int count)
    {
        // Sorting by (probability, place) is stable.
        var order = new int[probabilities.Length];
        var keys = new (double, int)[order.Length];
        for (int i = 0; i < order.Length; i++)
        {
            order[i] = i;
            keys[i] = (probabilities[i], i);
        }
        Array.Sort(keys, order);
        (int size, int larger) = Math.DivRem(order.Length, count);
        double error = 0;
        int start = 0;
        for (int group = 0; group < count; group++)
        {
            int end = start + size + (group < larger ? 1 : 0);
            double difference = 0;
            for (int i = start; i < end; i++) difference += labels[order[i]] - probabilities[order[i]];
            error += Math.Abs(difference);
            start = end;
        }
        return error / order.Length;
    }
}

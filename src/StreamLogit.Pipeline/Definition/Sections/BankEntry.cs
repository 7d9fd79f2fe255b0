using System.Collections.Immutable;
using System.Text.Json;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>One entry of the bank: an update rule and, for each of its numbers, the values to combine.</summary>
internal sealed class BankEntry
{
    private readonly UpdateRule _rule;

    /// <summary>The values of each number, in the order of the rule's numbers.</summary>
    private readonly double[][] _values;

    /// <summary>The numbers in the order in which the entry writes them; those it does not write have one value and come in no order.</summary>
    private readonly int[] _written;

    private BankEntry(UpdateRule rule, double[][] values, int[] written) => (_rule, _values, _written) = (rule, values, written);

    /// <summary>How many settings the entry makes.</summary>
    public long Count => _values.Aggregate(1L, (product, values) => Math.Min(product * values.Length, int.MaxValue));

    /// <summary>Reads an entry, or adds errors and gives null.</summary>
    /// <param name="value">The entry.</param>
    /// <param name="features">The features, or null where they are wrong.</param>
    public static BankEntry? Read(ValueReader value, ImmutableArray<FeatureOptions>? features)
    {
        if (value.Object() is not { } entry) return null;
        var update = entry.Required("update", $"it names the update rule, one of {Quoted.List(UpdateRules.All.Select(rule => rule.Name))}");
        if (update is null) return null;
        var rule = UpdateRules.All.FirstOrDefault(rule => rule.Name == update.Value.Text && update.Value.Kind == JsonValueKind.String);
        if (rule is null)
        {
            update.UnknownName([.. UpdateRules.All.Select(known => known.Name)]);
            return null;
        }
        if (features is { } known) CheckFeatures(update, rule, known);
        var read = rule.Numbers.Select(number => ReadValues(entry, number)).ToList();
        entry.End();
        if (read.Contains(null)) return null;
        var keys = rule.Numbers.Select(number => number.Key).ToList();
        return new BankEntry(rule, [.. read.Select(values => values!)], [.. entry.Written().Select(key => keys.IndexOf(key)).Where(index => index >= 0)]);
    }

    /// <summary>The settings: the last number that the entry writes changes fastest.</summary>
    public IEnumerable<SettingOptions> Settings()
    {
        for (long index = 0; index < Count; index++)
        {
            double[] numbers = [.. _values.Select(values => values[0])];
            long rest = index;
            foreach (int number in _written.Reverse())
            {
                (rest, long digit) = Math.DivRem(rest, _values[number].Length);
                numbers[number] = _values[number][digit];
            }
            yield return _rule.Create(numbers);
        }
    }

    private static void CheckFeatures(ValueReader update, UpdateRule rule, ImmutableArray<FeatureOptions> features)
    {
        int dense = features.Sum(feature => feature.DenseCoefficients);
        if (rule.MostDenseCoefficients is { } most && (dense < 1 || dense > most))
            update.Error($"{rule.Name} learns only the coefficients of numbers and cycles, from 1 to {most} of them, and these features have {dense}: choose another rule");
        if (!rule.LetsFeaturesForget && features.FirstOrDefault(feature => feature.ForgetHalfLifeMicroseconds > 0) is { } forgotten)
        {
            update.Error(
                $"{rule.Name} learns all coefficients together and cannot let those of one feature fade, as \"forget\" of the feature {Quoted.Text(forgotten.Name)} says:"
                + $" leave out either. An entry of the bank can have \"forget\" for all features");
        }
    }

    private static double[]? ReadValues(ObjectReader entry, RuleNumber number)
    {
        var value = number.Default is null ? entry.Required(number.Key, $"{number.InWords}, or a list of them") : entry.Optional(number.Key);
        if (value is null) return number.Default is { } absent ? [absent] : null;
        if (value.OneOrList("values", BankSection.MostSettings) is not { } items) return null;
        var values = new List<double>();
        foreach (var item in items)
        {
            if (number.Read(item) is not { } read) continue;
            if (values.Contains(read)) item.Error($"{item.Value.Describe()} is there twice: keep one");
            else values.Add(read);
        }
        return values.Count == items.Length ? [.. values] : null;
    }
}

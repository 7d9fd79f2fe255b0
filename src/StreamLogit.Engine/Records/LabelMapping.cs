using System.Collections.Immutable;
using System.Globalization;
using System.Text;

namespace StreamLogit.Engine.Records;

/// <summary>
/// What the label field may hold and which label that means. A string is compared by its characters, a number by its value as a double,
/// <c>true</c> and <c>false</c> as these words. Of two keys of equal value (1 and 1.0) a number gets the label of the first in ordinal order.
/// </summary>
internal sealed class LabelMapping
{
    private readonly byte[][] _texts;
    private readonly int[] _labels;
    private readonly double[] _numbers;
    private readonly int[] _numberLabels;
    private readonly int _longestText;

    /// <summary>A mapping with the label values of a definition.</summary>
    public LabelMapping(ImmutableDictionary<string, int> values)
    {
        // The order of the dictionary differs between processes.
        var sorted = values.OrderBy(pair => pair.Key, StringComparer.Ordinal).ToArray();
        var numeric = sorted.Where(pair => JsonNumber.IsNumber(Encoding.UTF8.GetBytes(pair.Key))).ToArray();
        _texts = [.. sorted.Select(pair => Encoding.UTF8.GetBytes(pair.Key))];
        _labels = [.. sorted.Select(pair => pair.Value)];
        _numbers = [.. numeric.Select(pair => double.Parse(pair.Key, NumberStyles.Float, CultureInfo.InvariantCulture))];
        _numberLabels = [.. numeric.Select(pair => pair.Value)];
        _longestText = _texts.Length == 0 ? 0 : _texts.Max(text => text.Length);
        Wanted = "one of " + string.Join(", ", sorted.Select(pair => pair.Key));
    }

    /// <summary>What the label should be, for people.</summary>
    public string Wanted { get; }

    /// <summary>Whether a string of so many bytes, escaped or not, can be in the mapping: an escape has at most six bytes for one.</summary>
    public bool MayContain(int length) => length <= _longestText * 6;

    /// <summary>The label that a text means.</summary>
    public bool TryGet(ReadOnlySpan<byte> text, out int label)
    {
        for (int i = 0; i < _texts.Length; i++)
        {
            if (!text.SequenceEqual(_texts[i])) continue;
            label = _labels[i];
            return true;
        }
        label = 0;
        return false;
    }

    /// <summary>The label that a number means.</summary>
    public bool TryGet(double number, out int label)
    {
        int index = Array.IndexOf(_numbers, number);
        label = index < 0 ? 0 : _numberLabels[index];
        return index >= 0 && double.IsFinite(number);
    }
}

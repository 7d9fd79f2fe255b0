using System.Globalization;
using System.Text.RegularExpressions;

namespace StreamLogit.Worker.Tests.Telemetry;

/// <summary>Reads OpenMetrics text, version 1.0.0, and throws where it breaks the rules of that format.</summary>
internal sealed partial class OpenMetricsText
{
    private static readonly Dictionary<string, string[]> Suffixes = new()
    {
        ["counter"] = ["_total", "_created"],
        ["gauge"] = [""],
        ["histogram"] = ["_bucket", "_sum", "_count", "_created"],
        ["info"] = ["_info"],
        ["unknown"] = [""],
    };

    private readonly HashSet<string> _seen = [];
    private readonly HashSet<string> _series = [];
    private string? _family;
    private string? _type;
    private bool _hasSamples;

    private OpenMetricsText(string text)
    {
        Require(text.EndsWith("# EOF\n", StringComparison.Ordinal), "the end", "it must be '# EOF' and a line feed");
        Require(!text.Contains('\r'), "the text", "it holds a carriage return");
        string[] lines = text.Split('\n');
        foreach (string line in lines.Take(lines.Length - 2)) Read(line);
        CheckHistograms();
    }

    /// <summary>The samples: name, labels, value.</summary>
    public List<(string Family, string Name, Dictionary<string, string> Labels, double Value)> Samples { get; } = [];

    /// <summary>The families with their types.</summary>
    public Dictionary<string, string> Families { get; } = [];

    public static OpenMetricsText Parse(string text) => new(text);

    public double ValueOf(string name) => Samples.Single(sample => sample.Name == name).Value;

    private void Read(string line)
    {
        Require(line.Length > 0, "a line", "it is empty");
        if (!line.StartsWith('#')) ReadSample(line);
        else ReadMetadata(line);
    }

    private void ReadMetadata(string line)
    {
        var match = Metadata().Match(line);
        Require(match.Success, line, "this is no metadata");
        string kind = match.Groups[1].Value, family = match.Groups[2].Value, rest = match.Groups[3].Value;
        if (family != _family)
        {
            Require(_seen.Add(family), line, "the lines of a family must stand together");
            (_family, _type, _hasSamples) = (family, "unknown", false);
        }
        Require(!_hasSamples, line, "metadata must come before the samples");
        if (kind == "TYPE")
        {
            Require(Suffixes.ContainsKey(rest), line, "there is no such type");
            _type = rest;
            Families[family] = rest;
        }
        if (kind == "UNIT") Require(rest.Length > 0 && family.EndsWith("_" + rest, StringComparison.Ordinal), line, "the name must end with the unit");
        if (kind == "HELP") Require(!BadEscape().IsMatch(rest), line, "there is an escape that does not exist");
    }

    private void ReadSample(string line)
    {
        var match = Sample().Match(line);
        Require(match.Success, line, "this is no sample");
        string name = match.Groups[1].Value;
        Require(_family is not null && Suffixes[_type!].Any(suffix => name == _family + suffix), line, $"the sample does not belong to the {_type} {_family}");
        _hasSamples = true;
        var labels = new Dictionary<string, string>();
        foreach (Match label in Label().Matches(match.Groups[2].Value)) Require(labels.TryAdd(label.Groups[1].Value, label.Groups[2].Value), line, "a label is there twice");
        Require(_series.Add(name + string.Join(',', labels.OrderBy(label => label.Key, StringComparer.Ordinal))), line, "the sample is there twice");
        double value = match.Groups[3].Value switch
        {
            "+Inf" => double.PositiveInfinity,
            "-Inf" => double.NegativeInfinity,
            "NaN" => double.NaN,
            var number => double.Parse(number, CultureInfo.InvariantCulture),
        };
        if (_type is "counter" or "histogram" && !name.EndsWith("_sum", StringComparison.Ordinal)) Require(value >= 0, line, "it counts, so it must not be below 0");
        Samples.Add((_family!, name, labels, value));
    }

    private void CheckHistograms()
    {
        foreach (string family in Families.Where(family => family.Value == "histogram").Select(family => family.Key))
        {
            foreach (var series in Samples.Where(sample => sample.Name == family + "_bucket").GroupBy(sample => Key(sample.Labels)))
            {
                var buckets = series.Select(bucket => (Bound: bucket.Labels["le"] == "+Inf" ? double.PositiveInfinity : double.Parse(bucket.Labels["le"], CultureInfo.InvariantCulture), bucket.Value)).ToList();
                Require(buckets.Zip(buckets.Skip(1)).All(pair => pair.First.Bound < pair.Second.Bound && pair.First.Value <= pair.Second.Value), family, "buckets must rise");
                Require(double.IsPositiveInfinity(buckets[^1].Bound), family, "the last bucket must be +Inf");
                double count = Samples.Single(sample => sample.Name == family + "_count" && Key(sample.Labels) == series.Key).Value;
                Require(buckets[^1].Value == count, family, "the last bucket must be the count");
            }
        }

        static string Key(Dictionary<string, string> labels) => string.Join(',', labels.Where(label => label.Key != "le").OrderBy(label => label.Key, StringComparer.Ordinal));
    }

    private static void Require(bool isRight, string where, string rule)
    {
        if (!isRight) throw new FormatException($"{where}: {rule}");
    }

    [GeneratedRegex("^# (TYPE|UNIT|HELP) ([a-zA-Z_:][a-zA-Z0-9_:]*) (.*)$")]
    private static partial Regex Metadata();

    [GeneratedRegex("""^([a-zA-Z_:][a-zA-Z0-9_:]*)(?:\{((?:[a-zA-Z_][a-zA-Z0-9_]*="(?:[^"\\]|\\[\\"n])*",?)*)\})? (NaN|[+-]Inf|[+-]?[0-9.]+(?:[eE][+-]?[0-9]+)?)$""")]
    private static partial Regex Sample();

    [GeneratedRegex("""([a-zA-Z_][a-zA-Z0-9_]*)="((?:[^"\\]|\\[\\"n])*)"(?:,|$)""")]
    private static partial Regex Label();

    [GeneratedRegex("""(?<!\\)(?:\\\\)*\\[^\\n"]""")]
    private static partial Regex BadEscape();
}

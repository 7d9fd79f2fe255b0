namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>A number of an update rule: a plain one, a duration in microseconds, or a flag, which is 0 or 1.</summary>
internal sealed class RuleNumber
{
    private readonly Func<ValueReader, double?> _read;

    private RuleNumber(string key, double? absent, string inWords, Func<ValueReader, double?> read) =>
        (Key, Default, InWords, _read) = (key, absent, inWords, read);

    /// <summary>Its key.</summary>
    public string Key { get; }

    /// <summary>Its value where the key is absent, or null where it must be there.</summary>
    public double? Default { get; }

    /// <summary>What it is, for the message that it is missing.</summary>
    public string InWords { get; }

    /// <summary>A plain number.</summary>
    public static RuleNumber Number(string key, NumberRange range, double? absent = null) =>
        new(key, absent, range.InWords, value => value.Number(range));

    /// <summary>A duration, 0 where it is absent. Exact, because a double holds every microsecond of 285 years.</summary>
    public static RuleNumber Duration(string key, long minimumMicroseconds, long maximumMicroseconds) =>
        new(key, 0, "a duration", value => value.Duration(minimumMicroseconds, maximumMicroseconds));

    /// <summary>A flag, false where it is absent.</summary>
    public static RuleNumber Flag(string key) =>
        new(key, 0, "true or false", value => value.Flag() is { } flag ? (flag ? 1 : 0) : null);

    /// <summary>Reads one value, or adds an error and gives null.</summary>
    public double? Read(ValueReader value) => _read(value);
}

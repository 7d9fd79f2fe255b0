namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>A number of an update rule.</summary>
/// <param name="Key">Its key.</param>
/// <param name="Default">Its value where the key is absent, or null where it must be there.</param>
/// <param name="Range">What it may be.</param>
internal sealed record RuleNumber(string Key, double? Default, NumberRange Range)
{
    /// <summary>Reads one value, or adds an error and gives null.</summary>
    public double? Read(ValueReader value) => value.Number(Range);
}

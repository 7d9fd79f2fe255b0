using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>An update rule that the bank can hold.</summary>
/// <param name="Name">What <c>update</c> calls it.</param>
/// <param name="Numbers">Its numbers.</param>
/// <param name="Create">Makes a setting of the numbers, which are in the order of <paramref name="Numbers"/>.</param>
internal sealed record UpdateRule(string Name, IReadOnlyList<RuleNumber> Numbers, Func<double[], SettingOptions> Create)
{
    /// <summary>The most dense coefficients that the rule takes, of which it needs at least one; null where it takes any number and hashed ones too.</summary>
    public int? MostDenseCoefficients { get; init; }

    /// <summary>Whether a feature may have its own <c>forget</c>. Default true.</summary>
    public bool LetsFeaturesForget { get; init; } = true;
}

using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>The update rules that the bank can hold, each with its numbers.</summary>
internal static class UpdateRules
{
    public const long ShortestForgetMicroseconds = 1_000_000;
    public const long LongestForgetMicroseconds = 36_525L * 24 * 3600 * 1_000_000;

    public static IReadOnlyList<UpdateRule> All { get; } =
    [
        Rule(
            "sgd",
            [
                RuleNumber.Number("step", NumberRange.PositiveToMillion),
                RuleNumber.Number("stepDecay", NumberRange.ZeroToOne, absent: 0),
                RuleNumber.Number("weightDecay", NumberRange.NotNegative, absent: 0),
                RuleNumber.Flag("overshootProof"),
            ],
            numbers => new SgdSetting(numbers[0], numbers[1], numbers[2]) { IsOvershootProof = numbers[3] == 1 }),
        Rule(
            "adagrad",
            [
                RuleNumber.Number("step", NumberRange.PositiveToMillion),
                RuleNumber.Number("sumHalfLife", NumberRange.NotNegative, absent: 0),
            ],
            numbers => new AdagradSetting(numbers[0], numbers[1])),
        Rule(
            "ftrl",
            [
                RuleNumber.Number("step", NumberRange.PositiveToMillion),
                RuleNumber.Number("beta", NumberRange.Positive, absent: 1),
                RuleNumber.Number("l1", NumberRange.NotNegative, absent: 0),
                RuleNumber.Number("l2", NumberRange.NotNegative, absent: 0),
            ],
            numbers => new FtrlSetting(numbers[0], numbers[1], numbers[2], numbers[3])),
        Rule(
            "newton",
            [
                RuleNumber.Number("forgetting", NumberRange.PositiveToOne, absent: 1),
                RuleNumber.Number("prior", NumberRange.PositiveToMillion, absent: 1),
            ],
            numbers => new NewtonSetting(numbers[0], numbers[1])) with { MostDenseCoefficients = NewtonSetting.MostDenseCoefficients, LetsFeaturesForget = false },
    ];

    /// <summary>A rule with its own numbers and <c>forget</c>, which every rule has, as the last.</summary>
    private static UpdateRule Rule(string name, IReadOnlyList<RuleNumber> own, Func<double[], SettingOptions> create) => new(
        name,
        [.. own, RuleNumber.Duration("forget", ShortestForgetMicroseconds, LongestForgetMicroseconds)],
        numbers => create(numbers) with { ForgetHalfLifeMicroseconds = (long)numbers[^1] });
}

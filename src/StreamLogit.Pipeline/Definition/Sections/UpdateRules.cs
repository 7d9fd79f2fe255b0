using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>The update rules that the bank can hold, each with its numbers.</summary>
internal static class UpdateRules
{
    public static IReadOnlyList<UpdateRule> All { get; } =
    [
        new("sgd",
            [
                RuleNumber.Number("step", NumberRange.Positive),
                RuleNumber.Number("stepDecay", NumberRange.ZeroToOne, absent: 0),
                RuleNumber.Number("weightDecay", NumberRange.NotNegative, absent: 0),
            ],
            numbers => new SgdSetting(numbers[0], numbers[1], numbers[2])),
    ];
}

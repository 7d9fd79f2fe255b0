using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>The update rules that the bank can hold, each with its numbers.</summary>
internal static class UpdateRules
{
    public static IReadOnlyList<UpdateRule> All { get; } =
    [
        new("sgd",
            [
                new("step", null, NumberRange.Positive),
                new("stepDecay", 0, NumberRange.ZeroToOne),
                new("weightDecay", 0, NumberRange.NotNegative),
            ],
            numbers => new SgdSetting(numbers[0], numbers[1], numbers[2])),
    ];
}

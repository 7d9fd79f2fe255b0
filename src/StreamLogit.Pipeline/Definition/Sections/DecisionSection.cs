using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>decision</c>: from which probability a decision is an alert.</summary>
internal static class DecisionSection
{
    public static DecisionOptions Read(ValueReader? value)
    {
        var defaults = new DecisionOptions();
        if (value?.Object() is not { } section) return defaults;
        double? cutoff = section.Optional("cutoff")?.Number(NumberRange.ZeroToOne);
        section.End();
        return defaults with { Cutoff = cutoff ?? defaults.Cutoff };
    }
}

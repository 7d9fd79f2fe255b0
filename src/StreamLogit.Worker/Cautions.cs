using System.Collections.Immutable;

namespace StreamLogit.Worker;

/// <summary>What whoever acts on scores has to know.</summary>
internal static class Cautions
{
    /// <summary>One caution a line.</summary>
    public static ImmutableArray<string> Lines { get; } =
    [
        "A score is an estimate from past labels. It is not a finding about a person or a machine.",
        "Automated decisions about people, and safety functions of machines, are regulated. Follow the rules of your place and ask those licensed to judge.",
        "Never let a score be the only thing that protects people or plant.",
    ];
}

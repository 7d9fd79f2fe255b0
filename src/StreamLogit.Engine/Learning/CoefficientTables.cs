using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Learning;

/// <summary>What the tables of a bank take, known before any is made.</summary>
public static class CoefficientTables
{
    // A table is one array. What is kept free of its greatest length is for dense slots, of which there are thousands at most.
    private const long MostDoublesOfATable = 2_080_000_000;

    /// <summary>The bytes of all tables together, without the dense slots.</summary>
    public static long Bytes(LearningOptions options) =>
        (long)options.Slots * LearnerGroup.DoublesPerSlot(options.Bank) * sizeof(double);

    /// <summary>The same, with what is kept of slots because features forget.</summary>
    public static long Bytes(EngineDefinition definition) => Bytes(definition.Learning)
        + (definition.Features.Any(feature => feature.ForgetHalfLifeMicroseconds > 0) ? (long)definition.Learning.Slots * SlotForgetting.BytesPerSlot : 0);

    /// <summary>Whether every table has the length of an array at most.</summary>
    public static bool CanBeMade(LearningOptions options) => options.Bank.GroupBy(setting => setting.GetType())
        .All(rule => (long)options.Slots * LearnerGroup.DoublesPerSlot([.. rule]) <= MostDoublesOfATable);
}

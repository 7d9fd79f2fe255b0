using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Tests.Contracts;

/// <summary>Schemas and batches for tests that do not score.</summary>
internal static class Schemas
{
    public static EngineDefinition Definition { get; } = new()
    {
        Stream = "quay",
        Record = new RecordOptions(),
        Features = [new NumberFeature("amount", NumberScale.None), new CategoryFeature(["country"])],
    };

    public static RecordBatch NewBatch() => new(new RecordSchema(Definition));
}

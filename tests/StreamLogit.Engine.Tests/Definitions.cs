using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Tests;

internal static class Definitions
{
    /// <summary>One setting of sgd with a constant step, over the given features.</summary>
    public static EngineDefinition Of(params FeatureOptions[] features) => new()
    {
        Stream = "test",
        Record = new RecordOptions(),
        Features = [.. features],
        Learning = new LearningOptions { Slots = 1 << 10, Bank = [new SgdSetting(0.1, 0, 0)] },
    };
}

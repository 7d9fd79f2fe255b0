using System.Runtime.CompilerServices;

namespace StreamLogit.Kafka.Tests.Runs;

/// <summary>
/// Gives the process of the tests enough threads from the start: several workers and clients wait in it at once, each in calls that block, and on two cores the
/// pool adds only about one thread a second to the two it begins with.
/// </summary>
internal static class PoolThreads
{
    [ModuleInitializer]
    internal static void Provide() => ThreadPool.SetMinThreads(64, 64);
}

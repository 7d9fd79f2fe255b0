using System.Diagnostics;

namespace StreamLogit.Benchmarks.Kafka;

/// <summary>What a run over a filled topic took, from its first message on.</summary>
/// <param name="Messages">Messages read and written.</param>
/// <param name="Seconds">Wall time.</param>
/// <param name="CpuMicroseconds">Processor time of this process, without the broker's, for each message.</param>
/// <param name="AllocatedBytes">Managed bytes allocated for each message.</param>
internal readonly record struct KafkaRun(int Messages, double Seconds, double CpuMicroseconds, double AllocatedBytes)
{
    /// <summary>Messages a second.</summary>
    public double Rate => Messages / Seconds;

    /// <summary>Takes the time of a run that begins now.</summary>
    public static Func<int, KafkaRun> Begin()
    {
        var cpu = Process.GetCurrentProcess().TotalProcessorTime;
        long allocated = GC.GetTotalAllocatedBytes();
        var watch = Stopwatch.StartNew();
        return messages => new KafkaRun(
            messages,
            watch.Elapsed.TotalSeconds,
            (Process.GetCurrentProcess().TotalProcessorTime - cpu).TotalMicroseconds / messages,
            (GC.GetTotalAllocatedBytes() - allocated) / (double)messages);
    }
}

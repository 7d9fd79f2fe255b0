using System.Text;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

public class RecordDecoderAllocationTests
{
    [Fact]
    public void Decode_AfterWarmUp_AllocatesNothing()
    {
        string manyKeys = string.Join(',', Enumerable.Range(0, 60).Select(i => $"\"key{i}\":{i}"));
        byte[][] lines = [.. ((string[])
        [
            "{\"id\":\"t-81\",\"time\":\"2026-03-01T08:15:30.120Z\",\"amount\":41.5,\"country\":\"QX\",\"floor\":3,\"label\":1,\"weight\":2.5}",
            "{\"id\":\"t-\\u0038\",\"time\":\"2026-03-01T08:15:30.120Z\",\"amount\":0.16090718571138904,\"country\":\"K\\u00f6ln\",\"payment\":{\"fee\":1,\"x\":{\"y\":[]}}}",
            "{\"id\":12,\"label\":\"paid\",\"time\":\"2026-03-01T08:15:30.120+01:00\"}",
            "{\"id\":13,\"label\":\"p\\u0061id\",\"time\":\"2026-03-01T08:15:30.120+01:00\",\"amount\":3.14159265358979323846264338327950288}",
            $"{{\"id\":14,\"time\":\"2026-03-01T08:15:30Z\",\"o\":{{{manyKeys}}},\"\\u0061\\u0062\":{{\"\\u0063\":1,\"é\":2}}}}",
            $"{{\"id\":15,\"time\":\"2026-03-01T08:15:30Z\",{manyKeys}}}",
        ]).Select(Encoding.UTF8.GetBytes)];
        var decoder = new RecordDecoder(DecodedText.Schema);
        var batch = new RecordBatch(DecodedText.Schema);
        Run();
        // The runtime may allocate once in between, when it replaces code by better code; what the decoder allocates, it allocates every time.
        Assert.Equal(0, Enumerable.Range(0, 5).Min(_ => AllocatedBy(() =>
        {
            for (int i = 0; i < 20; i++) Run();
        })));
        Assert.All(batch.Records.ToArray(), record => Assert.Equal(RejectReason.None, record.Reason));

        static long AllocatedBy(Action action)
        {
            long before = GC.GetAllocatedBytesForCurrentThread();
            action();
            return GC.GetAllocatedBytesForCurrentThread() - before;
        }

        void Run()
        {
            batch.Clear();
            for (int i = 0; i < 600; i++) batch.Add(lines[i % lines.Length], i);
            decoder.Decode(batch);
        }
    }
}

using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Stages;

namespace StreamLogit.Pipeline.Tests.Stages;

public sealed class RecentRejectsTests
{
    [Fact]
    public void Add_ManyBatches_KeepsTheLatestThreeOfEachReason()
    {
        var recent = new RecentRejects();
        for (int batch = 0; batch < 10; batch++) recent.Add(Rejects(batch * 10, "{\"id\":", "{\"id\":", "[]"));

        Assert.Equal(
            [("not-json", "quay.jsonl:91"), ("not-json", "quay.jsonl:81"), ("not-json", "quay.jsonl:71"), ("not-object", "quay.jsonl:92"), ("not-object", "quay.jsonl:82"), ("not-object", "quay.jsonl:72")],
            recent.Examples.Select(example => (example.Reason, example.Position)));
    }

    [Fact]
    public void Add_LongRecord_KeepsItsBeginning()
    {
        var recent = new RecentRejects();
        recent.Add(Rejects(1, "[\"" + new string('x', 5000) + "\"]"));

        var example = Assert.Single(recent.Examples);
        Assert.Equal("[\"" + new string('x', 398) + " …", example.Record);
        Assert.NotNull(example.Detail);
    }

    [Fact]
    public void Examples_AskedForBefore_StayAsTheyWere()
    {
        var recent = new RecentRejects();
        recent.Add(Rejects(1, "[]"));
        var before = recent.Examples;
        recent.Add(Rejects(2, "[]"));

        Assert.Equal("quay.jsonl:1", Assert.Single(before).Position);
        Assert.Equal(2, recent.Examples.Length);
    }

    private static RecordBatch Rejects(long first, params string[] records)
    {
        var batch = ScoredBatch.Of(Schemas.Definition, first, records).Records;
        for (int i = 0; i < batch.Count; i++) batch.ListReject(i);
        return batch;
    }
}

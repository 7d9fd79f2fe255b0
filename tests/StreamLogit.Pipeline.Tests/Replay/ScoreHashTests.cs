using System.Security.Cryptography;
using System.Text;
using StreamLogit.Pipeline.Replay;

namespace StreamLogit.Pipeline.Tests.Replay;

public sealed class ScoreHashTests : ScoreSinkContract
{
    private protected override IScoreSink Open() => new ScoreHash();

    private protected override string Written(IScoreSink sink) => ((ScoreHash)sink).ToHexString();

    private protected override void Clear() { }

    // FIPS 180-4 gives this as the hash of the empty message.
    [Fact]
    public void ToHexString_NoScores_IsTheHashOfNothing()
    {
        using var hash = new ScoreHash();

        Assert.Equal("e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855", hash.ToHexString());
    }

    [Fact]
    public void ToHexString_Scores_CoversIdsAndProbabilityBits()
    {
        using var hash = new ScoreHash();
        hash.Start(null);
        ScoredBatch.Create(1, 4).WriteTo(hash);

        // 0.5, 0.25 and 0.2, the lowest byte first.
        byte[] message =
        [
            .. "t-1"u8, 0, 0, 0, 0, 0, 0, 0xe0, 0x3f,
            .. "t-3"u8, 0, 0, 0, 0, 0, 0, 0xd0, 0x3f,
            .. "t-4"u8, 0x9a, 0x99, 0x99, 0x99, 0x99, 0x99, 0xc9, 0x3f,
        ];
        Assert.Equal(Convert.ToHexStringLower(SHA256.HashData(message)), hash.ToHexString());
        Assert.Equal(3, hash.Flush());
    }

    [Fact]
    public void Write_IdLongerThanItsBuffer_IsCoveredWhole()
    {
        string id = new('i', 100_000);
        var batch = ScoredBatch.Of(Schemas.Definition, 1, $$"""{"id":"{{id}}","time":"2026-03-01T08:15:30Z"}""");
        batch.Scores.Add(out _) = new() { Probability = 0 };
        using var hash = new ScoreHash();
        batch.WriteTo(hash);

        Assert.Equal(Convert.ToHexStringLower(SHA256.HashData([.. Encoding.ASCII.GetBytes(id), .. new byte[8]])), hash.ToHexString());
    }
}

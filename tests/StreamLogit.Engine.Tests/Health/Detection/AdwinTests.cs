using StreamLogit.Engine.Health.Detection;

namespace StreamLogit.Engine.Tests.Health.Detection;

public class AdwinTests
{
    [Fact]
    public void Check_StationaryStreams_CutsAtMostAsOftenAsAsked()
    {
        const double Delta = 0.01;
        const int Streams = 200, Length = 5000;
        int cuts = 0, checks = 0;
        for (ulong stream = 0; stream < Streams; stream++)
        {
            var random = new FixedStream(1000 + stream);
            var adwin = new Adwin(Delta);
            for (int i = 0; i < Length; i++)
            {
                adwin.Add(random.Label(0.2), i);
                if (i % 32 != 31) continue;
                checks++;
                if (adwin.Check() is not null) cuts++;
            }
        }
        Assert.True(cuts <= Delta * checks, $"{cuts} cuts in {checks} checks");
    }

    [Fact]
    public void Check_MeanDoubles_SaysWhenAndWhatItWas()
    {
        var random = new FixedStream(5);
        var adwin = new Adwin(0.002);
        for (int i = 0; i < 10_000; i++) adwin.Add(random.Label(0.1), i);
        Assert.Null(adwin.Check());
        Assert.Equal(10_000, adwin.Count);

        AdwinCut? cut = null;
        int after = 0;
        while (cut is null && after < 5000)
        {
            adwin.Add(random.Label(0.2), 10_000 + after++);
            cut = adwin.Check();
        }
        Assert.NotNull(cut);
        Assert.InRange(after, 50, 800);
        Assert.InRange(cut.Value.SinceMicroseconds, 9_000, 10_000 + after);
        Assert.Equal(0.1, cut.Value.MeanBefore, 0.02);
        Assert.InRange(cut.Value.MeanAfter, 0.12, 0.35);
        Assert.Equal(cut.Value.CountAfter, adwin.Count);
    }

    [Fact]
    public void Add_AnyLength_KeepsCountAndMeanInLogarithmicMemory()
    {
        var random = new FixedStream(9);
        var adwin = new Adwin(1e-9);
        double sum = 0;
        for (int i = 0; i < 100_000; i++)
        {
            double x = random.Uniform();
            sum += x;
            adwin.Add(x, i);
        }
        Assert.Equal(100_000, adwin.Count);
        Assert.Equal(sum / 100_000, adwin.Mean, 1e-12);
    }

    [Fact]
    public void SaveAndLoad_InTheMiddle_GoesOnAlike()
    {
        var random = new FixedStream(11);
        var whole = new Adwin(0.002);
        var resumed = new Adwin(0.002);
        for (int i = 0; i < 3000; i++)
        {
            double x = random.Label(i < 2000 ? 0.1 : 0.4);
            whole.Add(x, i);
            resumed.Add(x, i);
            if (i % 500 == 0)
            {
                using var bytes = new MemoryStream();
                using (var writer = new BinaryWriter(bytes, System.Text.Encoding.UTF8, leaveOpen: true)) resumed.Save(writer);
                bytes.Position = 0;
                resumed = new Adwin(0.002);
                using var reader = new BinaryReader(bytes);
                resumed.Load(reader);
            }
            Assert.Equal(whole.Check(), resumed.Check());
        }
        Assert.Equal((whole.Count, whole.Mean), (resumed.Count, resumed.Mean));
        Assert.True(whole.Count < 1500);
    }
}

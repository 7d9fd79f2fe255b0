using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Engine.Tests.Learning;

public sealed class CoefficientTablesTests
{
    [Fact]
    public void Bytes_MixedBank_CountsWhatEveryRuleKeeps()
    {
        // Three settings of sgd take a row of four, one of ftrl keeps three numbers, newton keeps nothing for a hashed slot.
        var options = new LearningOptions
        {
            Slots = 1024,
            Bank = [new SgdSetting(1, 0, 0), new SgdSetting(2, 0, 0), new SgdSetting(3, 0, 0), new FtrlSetting(1, 1, 0, 0), new NewtonSetting(1, 1)],
        };

        Assert.Equal(1024 * (4 + 3) * sizeof(double), CoefficientTables.Bytes(options));
    }

    [Fact]
    public void Bytes_FeatureThatForgets_AddsWhatIsKeptOfEverySlot()
    {
        var definition = Definitions.Of(new NumberFeature("x", NumberScale.None));
        var forgetting = Definitions.Of(new NumberFeature("x", NumberScale.None) { ForgetHalfLifeMicroseconds = 1_000_000 });

        Assert.Equal(CoefficientTables.Bytes(definition.Learning), CoefficientTables.Bytes(definition));
        Assert.Equal(CoefficientTables.Bytes(definition) + 16 * definition.Learning.Slots, CoefficientTables.Bytes(forgetting));
    }

    [Theory]
    [InlineData(1 << 26, 24, true)]
    [InlineData(1 << 26, 32, false)]
    [InlineData(1 << 25, 56, true)]
    [InlineData(1 << 25, 64, false)]
    public void CanBeMade_Sgd_IsSoUpToTheLengthOfAnArray(int slots, int settings, bool expected)
    {
        var options = new LearningOptions { Slots = slots, Bank = [.. Enumerable.Range(1, settings).Select(i => new SgdSetting(i, 0, 0))] };

        Assert.Equal(expected, CoefficientTables.CanBeMade(options));
        Assert.Equal(expected, (long)slots * settings + 1_000_000 < Array.MaxLength);
    }
}

using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Detection;

/// <summary>One block through all stages: means over sets against reading direction by direction, and no memory taken.</summary>
public class BlockSignalsTests
{
    /// <summary>256 powers added in another order, through a matrix instead of one by one.</summary>
    private const double Rounding = 1e-12;

    public static TheoryData<bool, bool> Noises => new() { { false, false }, { true, false }, { true, true } };

    [Theory]
    [MemberData(nameof(Noises))]
    public void MeanOverASet_IsTheMeanOfItsDirections(bool dense, bool derivation)
    {
        (EvaluationPlan plan, BlockSignals signals, _, _) = Block(dense, derivation);
        LaneDirection[] set = [.. DirectionSets.Isotropic.Select(LaneDirection.Same)];
        Assert.Equal(derivation ? 9 : 8, plan.Measures.Count);
        foreach (IMeasure measure in plan.Measures)
        {
            signals.AskSet(set);
            Vector512<double> expected = IMeasure.MeanOfEach(measure, signals), found = measure.Mean(signals);
            for (int lane = 0; lane < LeadfieldBlock.Lanes; lane++)
            {
                RelativeAssert.Equal(expected[lane], found[lane], Rounding, $"{measure.Modality} {measure.Name}");
            }
        }
    }

    [Theory]
    [MemberData(nameof(Noises))]
    public void Block_PassesEveryStageWithoutTakingMemory(bool dense, bool derivation)
    {
        (EvaluationPlan plan, BlockSignals signals, LeadfieldBlock block, ILeadfieldSource source) = Block(dense, derivation);
        LaneDirection[] set = [.. DirectionSets.Isotropic.Select(LaneDirection.Same)];
        Vector512<double> sum = default;
        long taken = 0;
        for (int pass = 0; pass < 3; pass++)                    // the last pass counts: code is compiled and buffers stand by then
        {
            long before = GC.GetAllocatedBytesForCurrentThread();
            source.Fill(block);
            signals.Load(block);
            signals.AskSet(set);
            foreach (DirectionMode mode in (ReadOnlySpan<DirectionMode>)[DirectionMode.Alone, DirectionMode.OfSet, DirectionMode.Best])
            {
                signals.Ask(mode, set[3]);
                for (int m = 0; m < plan.Measures.Count; m++)
                {
                    sum += plan.Measures[m].Power(signals) + plan.Measures[m].Mean(signals);
                    signals.Ask(mode, set[5]);
                }
            }

            taken = GC.GetAllocatedBytesForCurrentThread() - before;
        }

        Assert.True(Vector512.GreaterThanAll(sum, Vector512<double>.Zero));
        Assert.Equal(0, taken);
    }

    private static (EvaluationPlan Plan, BlockSignals Signals, LeadfieldBlock Block, ILeadfieldSource Source) Block(bool dense, bool derivation)
    {
        const int electrodes = 9, channels = 13;
        var random = new Random(11);
        StudySetup setup = new SmallStudy
        {
            Eeg = SmallStudy.Random(random, LeadfieldBlock.Lanes, electrodes, 1e3),
            Meg = SmallStudy.Random(random, LeadfieldBlock.Lanes, channels, 1e-5),
            EegCovariance = dense ? SmallStudy.RandomCovariance(random, electrodes, 1e-6) : null,
            MegCovariance = dense ? SmallStudy.RandomCovariance(random, channels, 1e-13) : null,
            Derivations = derivation ? [("E0-E1", [1, -1, 0, 0, 0, 0, 0, 0, 0])] : [],
        }.Setup();
        NoiseCovariance noise = setup.Noise!.InBand(1, 100);
        var space = new SignalSpace(noise, setup.Reference, setup.Derivations, setup.MegNames, setup.MegKinds);
        var plan = new EvaluationPlan(setup.Study.Responses[0], space, setup.Study.Targets, setup.Study.Protocol, true, true);
        var signals = new BlockSignals(space, setup.Head, true);
        var block = new LeadfieldBlock(electrodes, channels);
        block.Load(setup.Regions[0].Positions, setup.Regions[0].SourceIndices);
        setup.Source.Fill(block);
        signals.Load(block);
        return (plan, signals, block, setup.Source);
    }
}
